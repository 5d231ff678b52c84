namespace Qc.Service.Http;

/// <summary>What a feature answers: a value, or the problem that stood in the way.</summary>
/// <typeparam name="T">The value.</typeparam>
public readonly record struct Outcome<T>
{
    private Outcome(T? value, Problem? problem)
    {
        Value = value;
        Problem = problem;
    }

    /// <summary>The value; meaningful only where <see cref="Problem"/> is null.</summary>
    public T? Value { get; }

    /// <summary>The problem, else null.</summary>
    public Problem? Problem { get; }

    /// <summary>A value.</summary>
    public static implicit operator Outcome<T>(T value) => new(value, null);

    /// <summary>A problem.</summary>
    public static implicit operator Outcome<T>(Problem problem) => new(default, problem);

    /// <summary>The answer of an endpoint.</summary>
    public IResult ToResult(Func<T, IResult> success) => Problem is null ? success(Value!) : Problem.ToResult();
}
