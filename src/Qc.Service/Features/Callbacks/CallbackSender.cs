using System.Globalization;
using System.Net;
using System.Net.Http.Headers;
using System.Net.Sockets;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json;
using Qc.Service.Features.Lots;
using Qc.Service.Hosting;
using Qc.Service.Http;

namespace Qc.Service.Features.Callbacks;

/// <summary>
/// Sends a lot to its callback, signed with the key of the audit log: the header Qc-Signature holds the ECDSA signature
/// (P-256, SHA-256, IEEE P1363, base64) over the UTF-8 bytes of the text
/// <code>
/// qc callback
/// {Qc-Time}
/// {SHA-256 of the body, lower-case hex}
/// </code>
/// each line ended by a line feed. Redirects are not followed, and the address is checked when the connection is made.
/// </summary>
public sealed class CallbackSender : IDisposable
{
    private static readonly TimeSpan Limit = TimeSpan.FromSeconds(15);
    private readonly SiteKeys _keys;
    private readonly TimeProvider _time;
    private readonly ILogger<CallbackSender> _logger;
    private readonly bool _toThisHost;
    private readonly HttpClient _client;

    /// <summary>Prepares the client.</summary>
    public CallbackSender(SiteKeys keys, TimeProvider time, QcOptions options, ILogger<CallbackSender> logger)
    {
        (_keys, _time, _logger, _toThisHost) = (keys, time, logger, options.CallbacksToThisHost);
        var handler = new SocketsHttpHandler { AllowAutoRedirect = false, UseProxy = false, UseCookies = false, ConnectCallback = ConnectAsync };
        _client = new HttpClient(handler) { Timeout = Limit, MaxResponseContentBufferSize = 64 * 1024 };
    }

    /// <summary>Text that is signed.</summary>
    public static string SignedText(string time, ReadOnlySpan<byte> body) => $"qc callback\n{time}\n{Convert.ToHexStringLower(SHA256.HashData(body))}\n";

    /// <summary>Sends the lot once.</summary>
    /// <exception cref="HttpRequestException">It was not taken; try again later.</exception>
    public async Task SendAsync(Uri address, LotDto lot, CancellationToken cancellation)
    {
        byte[] body = JsonSerializer.SerializeToUtf8Bytes(lot, Json.Options);
        string time = _time.GetUtcNow().UtcDateTime.ToString("yyyy-MM-ddTHH:mm:ss'Z'", CultureInfo.InvariantCulture);
        byte[] signature = _keys.LogKey.SignData(Encoding.UTF8.GetBytes(SignedText(time, body)), HashAlgorithmName.SHA256);
        using var request = new HttpRequestMessage(HttpMethod.Post, address) { Content = new ByteArrayContent(body) };
        request.Content.Headers.ContentType = new MediaTypeHeaderValue("application/json");
        request.Headers.Add("Qc-Time", time);
        request.Headers.Add("Qc-Signature", Convert.ToBase64String(signature));
        try
        {
            using HttpResponseMessage answer = await _client.SendAsync(request, HttpCompletionOption.ResponseHeadersRead, cancellation);
            answer.EnsureSuccessStatusCode();
        }
        catch (HttpRequestException e) when (e.InnerException is CallbackRefusedException)
        {
            _logger.LogWarning("The callback of lot {LotId} to {Host} is refused: it leads to an address that callbacks may not reach", lot.Id, address.Host);
        }
        catch (TaskCanceledException e) when (!cancellation.IsCancellationRequested)
        {
            throw new HttpRequestException($"The callback did not answer within {Limit.TotalSeconds} s.", e);
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _client.Dispose();

    /// <summary>Connects to the first allowed address of a name: the name is asked once, so it cannot change between check and use.</summary>
    private async ValueTask<Stream> ConnectAsync(SocketsHttpConnectionContext context, CancellationToken cancellation)
    {
        IPAddress[] addresses = await Dns.GetHostAddressesAsync(context.DnsEndPoint.Host, cancellation);
        IPAddress[] allowed = [.. addresses.Where(a => CallbackAddress.IsAllowed(a, _toThisHost))];
        if (allowed.Length == 0)
        {
            throw new CallbackRefusedException();
        }

        var socket = new Socket(SocketType.Stream, ProtocolType.Tcp) { NoDelay = true };
        try
        {
            await socket.ConnectAsync(allowed, context.DnsEndPoint.Port, cancellation);
            return new NetworkStream(socket, ownsSocket: true);
        }
        catch
        {
            socket.Dispose();
            throw;
        }
    }

    private sealed class CallbackRefusedException : IOException;
}
