using System.Net;
using System.Net.Sockets;
using System.Security.Cryptography;
using System.Text;
using System.Text.Json.Nodes;
using Qc.Service.Features.Callbacks;
using Qc.Service.Tests.Support;
using Xunit;

namespace Qc.Service.Tests.Callbacks;

[Collection(ServiceCollection.Name)]
public sealed class CallbackTests(ServiceFixture service)
{
    [Fact]
    public async Task The_lims_is_called_again_until_it_takes_the_outcome_and_can_tell_who_calls()
    {
        using var lims = new HttpListener();
        string address = $"http://127.0.0.1:{FreePort()}/hooks/";
        lims.Prefixes.Add(address);
        lims.Start();
        string product = await Plant.ProductAsync(service);
        JsonObject body = Plant.Lot(product);
        body["callback"] = address;
        JsonNode lot = await (await Plant.SubmitAsync(service.Lims, body)).JsonAsync();

        await AnswerAsync(lims, HttpStatusCode.ServiceUnavailable);
        (byte[] content, string time, string signature) = await AnswerAsync(lims, HttpStatusCode.NoContent);
        JsonNode reported = JsonNode.Parse(content)!;
        Assert.Equal((string?)lot["id"], (string?)reported["id"]);
        Assert.Equal("unreadable", (string?)reported["state"]);

        using var key = ECDsa.Create();
        key.ImportFromPem(await (await service.AsAsync(ServiceFixture.Auditor)).GetStringAsync("/api/v1/audit/key"));
        Assert.True(Verify(content));
        content[^2] ^= 1;
        Assert.False(Verify(content));

        bool Verify(byte[] text) => key.VerifyData(
            Encoding.UTF8.GetBytes(CallbackSender.SignedText(time, text)), Convert.FromBase64String(signature), HashAlgorithmName.SHA256);
    }

    private static async Task<(byte[] Content, string Time, string Signature)> AnswerAsync(HttpListener lims, HttpStatusCode status)
    {
        HttpListenerContext call = await lims.GetContextAsync().WaitAsync(TimeSpan.FromSeconds(60));
        using var buffer = new MemoryStream();
        await call.Request.InputStream.CopyToAsync(buffer);
        call.Response.StatusCode = (int)status;
        call.Response.Close();
        return (buffer.ToArray(), call.Request.Headers["Qc-Time"]!, call.Request.Headers["Qc-Signature"]!);
    }

    private static int FreePort()
    {
        using var listener = new TcpListener(IPAddress.Loopback, 0);
        listener.Start();
        return ((IPEndPoint)listener.LocalEndpoint).Port;
    }
}
