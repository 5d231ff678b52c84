namespace Qc.Verify;

/// <summary>The file given as key or certificate is not one: nothing was checked.</summary>
/// <param name="message">What is wrong.</param>
/// <param name="inner">What the reader said.</param>
internal sealed class UnusableKeyException(string message, Exception inner) : Exception(message, inner);
