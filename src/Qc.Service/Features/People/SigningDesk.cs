using Microsoft.AspNetCore.Identity;
using Qc.Evidence;
using Qc.Records;
using Qc.Records.People;
using Qc.Records.Reviews;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.People;

/// <summary>
/// Electronic signatures: the password is entered again at each signing (21 CFR 11.200), and what is signed is bound by
/// its hash (11.70). A wrong password counts towards the lockout.
/// </summary>
public sealed class SigningDesk(UserManager<Person> people, QcDbContext context, AccessLog log, IHttpContextAccessor http)
{
    /// <summary>Checks the signer's password; null where it is right.</summary>
    public async Task<Problem?> RefuseAsync(string user, string? password)
    {
        if (string.IsNullOrEmpty(password))
        {
            return Problem.InvalidField("/password", "Enter your password again: it is your signature.");
        }

        Person? person = await people.FindByNameAsync(user);
        if (person is null || !person.IsActive)
        {
            return Problem.SignInNeeded();
        }

        if (await people.IsLockedOutAsync(person))
        {
            return Problem.NotAllowed("This account is locked after several wrong passwords; try again later.");
        }

        if (await people.CheckPasswordAsync(person, password))
        {
            await people.ResetAccessFailedCountAsync(person);
            return null;
        }

        await people.AccessFailedAsync(person);
        await log.NoteAsync(http.HttpContext!, $"person:{person.UserName}", "signature.refused", "person", person.UserName!, "The password is wrong.");
        if (await people.IsLockedOutAsync(person))
        {
            await log.NoteAsync(http.HttpContext!, $"person:{person.UserName}", "account.locked", "person", person.UserName!, "Several wrong passwords one after the other.");
        }

        return Problem.Invalid("wrong-password", "The signature was refused", "The password is wrong.", new FieldError("/password", "The password is wrong."));
    }

    /// <summary>Adds a signature over canonical content to the context; the caller saves it with the fact.</summary>
    public async Task<Signature> SignAsync(
        string user, string meaning, string subjectType, string subjectId, string contentJson, DateTimeOffset at, CancellationToken cancellation)
    {
        cancellation.ThrowIfCancellationRequested();
        Person person = await people.FindByNameAsync(user) ?? throw new InvalidOperationException($"The signer {user} does not exist.");
        var statement = new SignatureStatement(
            person.PrintedName, person.UserName!, at, meaning, subjectType, subjectId, SignatureStatement.HashOfContent(contentJson));
        var signature = new Signature
        {
            Id = Ids.New(at),
            SubjectType = subjectType,
            SubjectId = subjectId,
            ContentSha256 = statement.ContentSha256,
            StatementJson = statement.ToCanonicalText(),
            Meaning = meaning,
            PersonUser = person.UserName!,
            PrintedName = person.PrintedName,
            At = at,
        };
        context.Signatures.Add(signature);
        return signature;
    }
}
