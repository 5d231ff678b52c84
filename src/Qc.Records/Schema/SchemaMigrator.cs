using System.Reflection;
using Npgsql;

namespace Qc.Records.Schema;

/// <summary>
/// Brings a database to the schema of this version: the numbered SQL files beside this class, each in one transaction, each
/// once. Plain SQL, because grants and triggers are the point and an inspector should be able to read them.
/// </summary>
public static class SchemaMigrator
{
    private const long LockKey = 0x5143_5343; // "QCSC": only one process migrates at a time.

    /// <summary>Applies what is missing, as the owner; returns how many files were applied.</summary>
    public static async Task<int> MigrateAsync(string ownerConnectionString, CancellationToken cancellation = default)
    {
        await using var connection = new NpgsqlConnection(ownerConnectionString);
        await connection.OpenAsync(cancellation);
        await Execute(connection, $"SELECT pg_advisory_lock({LockKey})", cancellation);
        try
        {
            await Execute(
                connection,
                "CREATE TABLE IF NOT EXISTS public.qc_schema (file text PRIMARY KEY, applied_at timestamptz NOT NULL DEFAULT now())",
                cancellation);
            int applied = 0;
            foreach ((string file, string sql) in Files())
            {
                applied += await ApplyAsync(connection, file, sql, cancellation) ? 1 : 0;
            }

            return applied;
        }
        finally
        {
            await Execute(connection, $"SELECT pg_advisory_unlock({LockKey})", CancellationToken.None);
        }
    }

    private static async Task<bool> ApplyAsync(NpgsqlConnection connection, string file, string sql, CancellationToken cancellation)
    {
        await using NpgsqlTransaction transaction = await connection.BeginTransactionAsync(cancellation);
        await using var known = new NpgsqlCommand("SELECT 1 FROM public.qc_schema WHERE file = $1", connection, transaction);
        known.Parameters.Add(new NpgsqlParameter { Value = file });
        if (await known.ExecuteScalarAsync(cancellation) is not null)
        {
            return false;
        }

        await Execute(connection, sql, cancellation);
        await using var note = new NpgsqlCommand("INSERT INTO public.qc_schema (file) VALUES ($1)", connection, transaction);
        note.Parameters.Add(new NpgsqlParameter { Value = file });
        await note.ExecuteNonQueryAsync(cancellation);
        await transaction.CommitAsync(cancellation);
        return true;
    }

    private static async Task Execute(NpgsqlConnection connection, string sql, CancellationToken cancellation)
    {
        await using var command = new NpgsqlCommand(sql, connection);
        await command.ExecuteNonQueryAsync(cancellation);
    }

    private static IEnumerable<(string File, string Sql)> Files()
    {
        Assembly assembly = typeof(SchemaMigrator).Assembly;
        foreach (string name in assembly.GetManifestResourceNames().Where(n => n.EndsWith(".sql", StringComparison.Ordinal)).Order(StringComparer.Ordinal))
        {
            using var reader = new StreamReader(assembly.GetManifestResourceStream(name)!);
            yield return (name, reader.ReadToEnd());
        }
    }
}
