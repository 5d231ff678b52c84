using Microsoft.AspNetCore.Identity;
using Qc.Records.People;

namespace Qc.Service.Features.Session;

/// <summary>Checks one-time and recovery codes.</summary>
internal static class SecondFactor
{
    private const string Provider = "qc";
    private const string LastCode = "last-code";

    /// <summary>Whether a code opens the account; a code that did is not taken again.</summary>
    public static async Task<bool> OpensAsync(UserManager<Person> people, Person person, string? code)
    {
        if (string.IsNullOrWhiteSpace(code))
        {
            return false;
        }

        string typed = Clean(code);
        if (await IsOneTimeCodeAsync(people, person, typed))
        {
            // RFC 6238, 5.2: the verifier must not accept the second attempt of a code.
            bool again = await people.GetAuthenticationTokenAsync(person, Provider, LastCode) == typed;
            await people.SetAuthenticationTokenAsync(person, Provider, LastCode, typed);
            return !again;
        }

        return (await people.RedeemTwoFactorRecoveryCodeAsync(person, code.Trim())).Succeeded;
    }

    /// <summary>Whether a code is that of the person's secret now.</summary>
    public static Task<bool> IsOneTimeCodeAsync(UserManager<Person> people, Person person, string code) =>
        people.VerifyTwoFactorTokenAsync(person, people.Options.Tokens.AuthenticatorTokenProvider, Clean(code));

    private static string Clean(string code) => code.Replace(" ", "", StringComparison.Ordinal);
}
