using Microsoft.AspNetCore.Authorization;
using Qc.Records.People;

namespace Qc.Service.Security;

/// <summary>Who may do what: one place. A person needs one of the roles, a key the scope.</summary>
public static class Policies
{
    /// <summary>Reads products and specifications.</summary>
    public const string Read = "read";

    /// <summary>Reads lots and certificates.</summary>
    public const string ReadLots = "read-lots";

    /// <summary>Submits lots.</summary>
    public const string SubmitLots = "submit-lots";

    /// <summary>Sets up products and drafts specifications.</summary>
    public const string ManageProducts = "manage-products";

    /// <summary>Approves specifications.</summary>
    public const string ApproveSpecifications = "approve-specifications";

    /// <summary>Decides on lots.</summary>
    public const string Review = "review";

    /// <summary>Withdraws certificates and has them replaced.</summary>
    public const string EndCertificates = "end-certificates";

    /// <summary>Reads the audit log.</summary>
    public const string Audit = "audit";

    /// <summary>Manages people and keys.</summary>
    public const string Administer = "administer";

    /// <summary>Scopes a key may have.</summary>
    public static IReadOnlyList<string> Scopes { get; } = ["lots:write", "lots:read", "products:write", "products:read", "audit:read"];

    /// <summary>Adds them.</summary>
    public static void Add(AuthorizationOptions options)
    {
        Add(options, Read, [.. Roles.All], ["products:read", "products:write"]);
        Add(options, ReadLots, [.. Roles.All], ["lots:read"]);
        Add(options, SubmitLots, [Roles.Submitter], ["lots:write"]);
        Add(options, ManageProducts, [Roles.MethodOwner], ["products:write"]);
        Add(options, ApproveSpecifications, [Roles.QualityUnit], []);
        Add(options, Review, [Roles.Reviewer], []);
        Add(options, EndCertificates, [Roles.QualityUnit], []);
        Add(options, Audit, [Roles.Auditor, Roles.QualityUnit, Roles.Administrator], ["audit:read"]);
        Add(options, Administer, [Roles.Administrator], []);
    }

    private static void Add(AuthorizationOptions options, string name, string[] roles, string[] scopes) =>
        options.AddPolicy(name, policy => policy.RequireAssertion(context =>
            Caller.IsPerson(context.User)
                ? roles.Any(context.User.IsInRole)
                : scopes.Any(scope => context.User.HasClaim(Caller.ScopeClaim, scope))));
}
