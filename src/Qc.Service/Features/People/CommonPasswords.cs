using Microsoft.AspNetCore.Identity;
using Qc.Records.People;

namespace Qc.Service.Features.People;

/// <summary>
/// Refuses passwords that guessers try first, as NIST SP 800-63B 5.1.1.2 asks (from memory): those of the bundled list
/// common-passwords.txt, repetitions of a short piece, runs along the alphabet, the digits or a keyboard row, and the
/// account's own name.
/// </summary>
public sealed class CommonPasswords : IPasswordValidator<Person>
{
    private static readonly string[] Rows =
        ["abcdefghijklmnopqrstuvwxyz", "01234567890123456789", "qwertyuiopasdfghjklzxcvbnm", "qwertzuiopasdfghjklyxcvbnm", "azertyuiopqsdfghjklmwxcvbn"];

    private static readonly HashSet<string> Listed = Read();

    /// <inheritdoc/>
    public Task<IdentityResult> ValidateAsync(UserManager<Person> manager, Person user, string? password) =>
        Task.FromResult(Obstacle(password ?? "", user.UserName ?? "") is { } obstacle
            ? IdentityResult.Failed(new IdentityError { Code = "PasswordTooCommon", Description = obstacle })
            : IdentityResult.Success);

    /// <summary>Why a password is refused; null where it is not.</summary>
    public static string? Obstacle(string password, string user)
    {
        string plain = new([.. password.ToLowerInvariant().Where(char.IsLetterOrDigit)]);
        if (Listed.Contains(plain) || Listed.Contains(plain.TrimEnd('0', '1', '2', '3', '4', '5', '6', '7', '8', '9')))
        {
            return "This password is on the list of those that are tried first; choose another.";
        }

        if (IsRepetition(plain) || Rows.Any(row => IsRun(row, plain)))
        {
            return "This password is a repetition or a run of keys; choose another.";
        }

        return user.Length >= 3 && password.Contains(user, StringComparison.OrdinalIgnoreCase)
            ? "The password must not hold the user name."
            : null;
    }

    /// <summary>A piece of at most six characters, over and over.</summary>
    private static bool IsRepetition(string text) =>
        text.Length >= 2 && Enumerable.Range(1, Math.Min(6, text.Length / 2)).Any(n => Enumerable.Range(n, text.Length - n).All(i => text[i] == text[i - n]));

    private static bool IsRun(string row, string text) =>
        text.Length >= 6 && (row.Contains(text, StringComparison.Ordinal) || row.Contains(string.Concat(text.Reverse()), StringComparison.Ordinal));

    private static HashSet<string> Read()
    {
        using var reader = new StreamReader(typeof(CommonPasswords).Assembly.GetManifestResourceStream("common-passwords.txt")!);
        return [.. reader.ReadToEnd().Split('\n', StringSplitOptions.RemoveEmptyEntries | StringSplitOptions.TrimEntries).Where(l => !l.StartsWith('#'))];
    }
}
