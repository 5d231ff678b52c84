namespace Qc.Records.PrivateServer;

/// <summary>The private server cannot be started; the message says why and what to do.</summary>
public sealed class PrivatePostgresException(string message, Exception? inner = null) : Exception(message, inner);
