using System.Collections.Immutable;

namespace Qc.Certificates;

/// <summary>All that a certificate shows, as text and numbers ready to print. Times are UTC.</summary>
public sealed record CertificateContent
{
    /// <summary>Certificate number, e.g. "QC-2026-000001".</summary>
    public required string Number { get; init; }

    /// <summary>Version for the lot, from 1.</summary>
    public int Version { get; init; } = 1;

    /// <summary>Number of the certificate that this one supersedes.</summary>
    public string? SupersedesNumber { get; init; }

    /// <summary>When it is issued.</summary>
    public required DateTimeOffset IssuedAt { get; init; }

    /// <summary>Plant or laboratory.</summary>
    public required string Laboratory { get; init; }

    /// <summary>The product.</summary>
    public required CertifiedProduct Product { get; init; }

    /// <summary>The lot.</summary>
    public required CertifiedLot Lot { get; init; }

    /// <summary>Specification version and its approval, e.g. "3, approved by Ana Lind on 2026-01-02".</summary>
    public required string Specification { get; init; }

    /// <summary>"pass" or "flag".</summary>
    public required string Verdict { get; init; }

    /// <summary>Why, in one or two sentences.</summary>
    public required string Summary { get; init; }

    /// <summary>SHA-256 of the canonical report, lower-case hex; must be that of the release.</summary>
    public required string ReportSha256 { get; init; }

    /// <summary>Findings, one for each acceptance criterion.</summary>
    public ImmutableArray<FindingRow> Findings { get; init; } = [];

    /// <summary>The proton ledger.</summary>
    public ImmutableArray<ProtonRow> Protons { get; init; } = [];

    /// <summary>Quantities with uncertainty.</summary>
    public ImmutableArray<QuantityRow> Quantities { get; init; } = [];

    /// <summary>Other substances seen.</summary>
    public ImmutableArray<SubstanceRow> OtherSubstances { get; init; } = [];

    /// <summary>Decisions of reviewers.</summary>
    public ImmutableArray<ReviewRow> Reviews { get; init; } = [];

    /// <summary>Electronic signatures.</summary>
    public ImmutableArray<SignatureRow> Signatures { get; init; } = [];

    /// <summary>Curves to draw.</summary>
    public CertificateTrace? Trace { get; init; }

    /// <summary>Cautions beside those that every certificate carries.</summary>
    public ImmutableArray<string> Cautions { get; init; } = [];

    /// <summary>The audit log at issue.</summary>
    public required AuditHeadRow AuditHead { get; init; }

    /// <summary>Spectra as received.</summary>
    public ImmutableArray<SpectrumRow> Spectra { get; init; } = [];

    /// <summary>Version of the service.</summary>
    public required string ServiceVersion { get; init; }

    /// <summary>Version of the engine.</summary>
    public required string EngineVersion { get; init; }

    /// <summary>Where the certificate's state is shown.</summary>
    public string? VerificationUrl { get; init; }

    /// <summary>The same data for machines; attached byte for byte in UTF-8.</summary>
    public required string MachineReadableJson { get; init; }
}

/// <summary>The product certified.</summary>
/// <param name="Code">Code.</param>
/// <param name="Name">Name.</param>
/// <param name="Smiles">Canonical SMILES.</param>
/// <param name="InchiKey">InChIKey.</param>
/// <param name="Formula">Formula in Hill order.</param>
/// <param name="MolarMassGramPerMol">Molar mass in g/mol.</param>
/// <param name="Drawing">Drawing of the structure.</param>
public sealed record CertifiedProduct(
    string Code, string Name, string Smiles, string InchiKey, string Formula, double MolarMassGramPerMol, StructureDrawing? Drawing = null);

/// <summary>The lot certified and how it was measured.</summary>
/// <param name="Id">Identifier; must be that of the release.</param>
/// <param name="Number">The plant's lot number.</param>
/// <param name="SampledAt">When it was sampled.</param>
/// <param name="ReceivedAt">When the spectra were received.</param>
/// <param name="Instrument">Instrument.</param>
/// <param name="FrequencyMHz">Proton frequency in MHz.</param>
/// <param name="Solvent">Solvent.</param>
public sealed record CertifiedLot(
    string Id, string Number, DateTimeOffset? SampledAt, DateTimeOffset ReceivedAt, string? Instrument, double? FrequencyMHz, string Solvent);

/// <summary>A structure as lines and atom labels in a box, y downwards, any unit of length.</summary>
/// <param name="Width">Width of the box.</param>
/// <param name="Height">Height of the box.</param>
/// <param name="Lines">Bonds.</param>
/// <param name="Labels">Atom labels, centred at their place.</param>
public sealed record StructureDrawing(
    double Width, double Height, ImmutableArray<DrawnLine> Lines, ImmutableArray<DrawnLabel> Labels);

/// <summary>A straight line.</summary>
/// <param name="X1">Start.</param>
/// <param name="Y1">Start.</param>
/// <param name="X2">End.</param>
/// <param name="Y2">End.</param>
public sealed record DrawnLine(double X1, double Y1, double X2, double Y2);

/// <summary>A label.</summary>
/// <param name="X">Centre.</param>
/// <param name="Y">Centre.</param>
/// <param name="Text">Text.</param>
public sealed record DrawnLabel(double X, double Y, string Text);

/// <summary>A finding.</summary>
/// <param name="Criterion">Criterion, e.g. "identity.shift".</param>
/// <param name="Subject">Subject, e.g. "H-4".</param>
/// <param name="Statement">One plain sentence.</param>
/// <param name="Observed">Observed value with unit and uncertainty.</param>
/// <param name="Limit">Limit with unit.</param>
/// <param name="Outcome">"pass" or "flag".</param>
public sealed record FindingRow(string Criterion, string Subject, string Statement, string Observed, string Limit, string Outcome);

/// <summary>A line of the proton ledger.</summary>
/// <param name="Group">Group, e.g. "H-4".</param>
/// <param name="ExpectedCount">Protons expected.</param>
/// <param name="ObservedCount">Protons found.</param>
/// <param name="ExpectedPpm">Shift expected, with uncertainty.</param>
/// <param name="ObservedPpm">Shift found.</param>
/// <param name="Splitting">Splitting and couplings.</param>
/// <param name="Remark">Remark.</param>
public sealed record ProtonRow(
    string Group, string ExpectedCount, string ObservedCount, string ExpectedPpm, string ObservedPpm, string Splitting, string Remark);

/// <summary>A quantity.</summary>
/// <param name="Name">Name.</param>
/// <param name="Value">Value with unit.</param>
/// <param name="Uncertainty">Expanded uncertainty with coverage factor.</param>
public sealed record QuantityRow(string Name, string Value, string Uncertainty);

/// <summary>Another substance.</summary>
/// <param name="Name">Name.</param>
/// <param name="Role">Role.</param>
/// <param name="Amount">Amount with unit.</param>
public sealed record SubstanceRow(string Name, string Role, string Amount);

/// <summary>A reviewer's decision.</summary>
/// <param name="Decision">Decision.</param>
/// <param name="By">Printed name.</param>
/// <param name="At">When.</param>
/// <param name="Reason">Reason.</param>
public sealed record ReviewRow(string Decision, string By, DateTimeOffset At, string Reason);

/// <summary>An electronic signature.</summary>
/// <param name="PrintedName">Printed name.</param>
/// <param name="At">When.</param>
/// <param name="Meaning">Meaning.</param>
/// <param name="StatementSha256">SHA-256 of the signed statement.</param>
public sealed record SignatureRow(string PrintedName, DateTimeOffset At, string Meaning, string StatementSha256);

/// <summary>Curves on one axis.</summary>
/// <param name="FirstPpm">Shift of point 0, the highest.</param>
/// <param name="PpmPerPoint">Step, negative.</param>
/// <param name="Measured">The spectrum.</param>
/// <param name="Modelled">The fitted model.</param>
/// <param name="LeftOver">Measured minus modelled.</param>
public sealed record CertificateTrace(double FirstPpm, double PpmPerPoint, float[] Measured, float[] Modelled, float[] LeftOver);

/// <summary>The audit log at issue.</summary>
/// <param name="Size">Entries.</param>
/// <param name="RootHex">Root, lower-case hex.</param>
/// <param name="At">When the head was signed.</param>
public sealed record AuditHeadRow(long Size, string RootHex, DateTimeOffset At);

/// <summary>A spectrum as received.</summary>
/// <param name="Name">The submitter's name for it.</param>
/// <param name="Sha256">SHA-256 of the bytes, lower-case hex.</param>
public sealed record SpectrumRow(string Name, string Sha256);
