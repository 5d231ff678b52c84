using System.Security.Cryptography;
using System.Text.Json.Nodes;
using Microsoft.AspNetCore.Identity;
using Microsoft.EntityFrameworkCore;
using Qc.Records;
using Qc.Records.Audit;
using Qc.Records.People;
using Qc.Service.Http;
using Qc.Service.Security;

namespace Qc.Service.Features.People;

/// <summary>A new account.</summary>
public sealed record PersonRequest
{
    /// <summary>User name.</summary>
    public required string User { get; init; }

    /// <summary>Name as printed beside signatures.</summary>
    public required string PrintedName { get; init; }

    /// <summary>First password; where left out, one is made, shown once, and must be changed at the first sign-in.</summary>
    public string? Password { get; init; }

    /// <summary>Whether the first password must be changed at the first sign-in; always so for one that was made here.</summary>
    public bool MustChangePassword { get; init; }

    /// <summary>Roles.</summary>
    public required IReadOnlyList<string> Roles { get; init; }
}

/// <summary>An invitation: the first password, shown this once.</summary>
public sealed record InvitationDto(string User, string FirstPassword);

/// <summary>Why something of a person is ended.</summary>
public sealed record EndPersonRequest
{
    /// <summary>Why.</summary>
    public required string Reason { get; init; }
}

/// <summary>A new LIMS key.</summary>
public sealed record KeyRequest
{
    /// <summary>What it is for.</summary>
    public required string Name { get; init; }

    /// <summary>Scopes.</summary>
    public required IReadOnlyList<string> Scopes { get; init; }

    /// <summary>When it ends.</summary>
    public DateTimeOffset? ExpiresAt { get; init; }
}

/// <summary>A LIMS key as answered; <see cref="Key"/> is shown this once.</summary>
public sealed record KeyDto(string Id, string Name, IReadOnlyList<string> Scopes, DateTimeOffset? ExpiresAt, string? Key);

/// <summary>Accounts and keys. Every change is an audit entry.</summary>
public sealed class ManagePeople(UserManager<Person> people, RoleManager<IdentityRole> roles, QcDbContext context)
{
    /// <summary>Whether any account exists: without one, the set-up page makes the first administrator.</summary>
    public Task<bool> AnybodyAsync(CancellationToken cancellation) => context.Users.AnyAsync(cancellation);

    /// <summary>Makes an account.</summary>
    public async Task<Outcome<Person>> AddAsync(PersonRequest request, string actor, CancellationToken cancellation)
    {
        if (request.Roles.Except(Records.People.Roles.All).FirstOrDefault() is { } unknown)
        {
            return Problem.InvalidField("/roles", $"{unknown} is no role; choose from {string.Join(", ", Records.People.Roles.All)}.");
        }

        if (string.IsNullOrWhiteSpace(request.PrintedName))
        {
            return Problem.InvalidField("/printedName", "A signature needs a printed name.");
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        foreach (string role in Records.People.Roles.All)
        {
            if (!await roles.RoleExistsAsync(role))
            {
                await roles.CreateAsync(new IdentityRole(role));
            }
        }

        var person = new Person { UserName = request.User, PrintedName = request.PrintedName, LockoutEnabled = true, MustChangePassword = request.MustChangePassword };
        IdentityResult created = await people.CreateAsync(person, request.Password ?? "");
        if (!created.Succeeded)
        {
            IdentityError error = created.Errors.First();
            if (error.Code == nameof(IdentityErrorDescriber.DuplicateUserName))
            {
                return Problem.Conflict("user-exists", "There is such a user", error.Description);
            }

            string pointer = error.Code.Contains("Password", StringComparison.Ordinal) ? "/password" : "/user";
            return Problem.InvalidField(pointer, error.Description);
        }

        await people.AddToRolesAsync(person, request.Roles);
        await context.SaveWithAuditAsync(
            [
                new AuditDraft(actor, "person.added", "person", request.User, After: new JsonObject
                {
                    ["user"] = request.User,
                    ["printedName"] = request.PrintedName,
                    ["roles"] = new JsonArray([.. request.Roles.Select(r => (JsonNode)r)]),
                }),
            ],
            cancellation);
        await transaction.CommitAsync(cancellation);
        return person;
    }

    /// <summary>Makes an account with a first password that is in the answer and nowhere else, and serves once.</summary>
    public async Task<Outcome<InvitationDto>> InviteAsync(PersonRequest request, string actor, CancellationToken cancellation)
    {
        string password = Convert.ToHexStringLower(RandomNumberGenerator.GetBytes(12));
        Outcome<Person> made = await AddAsync(request with { Password = password, MustChangePassword = true }, actor, cancellation);
        return made.Problem is { } problem ? problem : new InvitationDto(request.User, password);
    }

    /// <summary>Ends every session of a person; closes the account, or turns its one-time codes off, where asked to.</summary>
    public async Task<Outcome<string>> EndAsync(string user, bool close, bool secondFactorOff, string reason, string actor, CancellationToken cancellation)
    {
        if (string.IsNullOrWhiteSpace(reason))
        {
            return Problem.InvalidField("/reason", "Say why.");
        }

        if (await people.FindByNameAsync(user) is not { } person)
        {
            return Problem.NotFound("person");
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        person.IsActive &= !close;
        if (secondFactorOff)
        {
            await people.SetTwoFactorEnabledAsync(person, false);
            await people.ResetAuthenticatorKeyAsync(person);
        }

        await people.UpdateSecurityStampAsync(person);
        string action = close ? "person.closed" : secondFactorOff ? "second-factor.off" : "sessions.ended";
        await context.SaveWithAuditAsync([new AuditDraft(actor, action, "person", person.UserName!, reason)], cancellation);
        await transaction.CommitAsync(cancellation);
        return person.UserName!;
    }

    /// <summary>Makes a LIMS key; its text is in the answer and nowhere else.</summary>
    public async Task<Outcome<KeyDto>> AddKeyAsync(KeyRequest request, string actor, CancellationToken cancellation)
    {
        if (string.IsNullOrWhiteSpace(request.Name))
        {
            return Problem.InvalidField("/name", "Say what the key is for.");
        }

        if (request.Scopes.Count == 0 || request.Scopes.Except(Policies.Scopes).Any())
        {
            return Problem.InvalidField("/scopes", $"Choose from {string.Join(", ", Policies.Scopes)}.");
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        (string id, string secret, string text) = LimsKeyHandler.NewKey(now);
        context.LimsKeys.Add(new LimsKey
        {
            Id = id,
            Name = request.Name,
            SecretSha256 = LimsKeyHandler.Hash(secret),
            Scopes = string.Join(' ', request.Scopes),
            ExpiresAt = request.ExpiresAt,
            CreatedAt = now,
            CreatedBy = actor,
        });
        await context.SaveWithAuditAsync(
            [
                new AuditDraft(actor, "key.added", "key", id, After: new JsonObject
                {
                    ["name"] = request.Name,
                    ["scopes"] = string.Join(' ', request.Scopes),
                }),
            ],
            cancellation);
        await transaction.CommitAsync(cancellation);
        return new KeyDto(id, request.Name, request.Scopes, request.ExpiresAt, text);
    }

    /// <summary>Ends a LIMS key at once.</summary>
    public async Task<Outcome<string>> RevokeKeyAsync(string id, string actor, CancellationToken cancellation)
    {
        if (!await context.LimsKeys.AnyAsync(k => k.Id == id, cancellation))
        {
            return Problem.NotFound("key");
        }

        if (await context.LimsKeyRevocations.AnyAsync(r => r.KeyId == id, cancellation))
        {
            return id;
        }

        await using var transaction = await context.Database.BeginTransactionAsync(cancellation);
        DateTimeOffset now = await context.DatabaseTimeAsync(cancellation);
        context.LimsKeyRevocations.Add(new LimsKeyRevocation { KeyId = id, At = now, By = actor });
        await context.SaveWithAuditAsync([new AuditDraft(actor, "key.revoked", "key", id)], cancellation);
        await transaction.CommitAsync(cancellation);
        return id;
    }
}
