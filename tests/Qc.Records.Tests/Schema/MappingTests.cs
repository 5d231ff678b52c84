using Microsoft.EntityFrameworkCore;
using Microsoft.EntityFrameworkCore.Metadata;
using Npgsql;
using Qc.Records.Schema;
using Xunit;

namespace Qc.Records.Tests.Schema;

[Collection(DatabaseCollection.Name)]
public class MappingTests(DatabaseFixture database)
{
    [Fact]
    public async Task Tables_columns_and_whether_they_may_be_null_are_the_same_in_the_database_and_in_the_mapping()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        await using QcDbContext context = DatabaseFixture.Context(owner);
        string[] mapped =
        [
            .. from type in context.Model.GetEntityTypes()
               let table = StoreObjectIdentifier.Table(type.GetTableName()!, type.GetSchema())
               from property in type.GetProperties()
               select $"{type.GetSchema()}.{type.GetTableName()}.{property.GetColumnName(table)} {(property.IsNullable ? "null" : "not null")}",
        ];
        Assert.Equal(await Columns(owner), mapped.Order(StringComparer.Ordinal));
    }

    [Fact]
    public async Task A_second_migration_finds_nothing_to_do()
    {
        (string owner, _) = await database.NewDatabaseAsync();
        Assert.Equal(0, await SchemaMigrator.MigrateAsync(owner));
    }

    private static async Task<string[]> Columns(string owner)
    {
        await using var connection = new NpgsqlConnection(owner);
        await connection.OpenAsync();
        await using var command = new NpgsqlCommand(
            """
            SELECT table_schema || '.' || table_name || '.' || column_name || CASE is_nullable WHEN 'YES' THEN ' null' ELSE ' not null' END
            FROM information_schema.columns WHERE table_schema IN ('qc', 'people')
            """,
            connection);
        await using NpgsqlDataReader reader = await command.ExecuteReaderAsync();
        var columns = new List<string>();
        while (await reader.ReadAsync())
        {
            columns.Add(reader.GetString(0));
        }

        return [.. columns.Order(StringComparer.Ordinal)];
    }
}
