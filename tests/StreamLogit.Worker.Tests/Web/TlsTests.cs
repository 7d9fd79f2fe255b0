using System.Net;
using System.Net.Http.Headers;
using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Web;

/// <summary>A page for others than this machine: TLS, a key in a file, and a name.</summary>
public sealed class TlsTests : IDisposable
{
    private const string Key = "a-key-that-nobody-guesses";
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public async Task Page_WithACertificate_IsServedOverTlsUnderItsNames()
    {
        using var ecdsa = ECDsa.Create(ECCurve.NamedCurves.nistP256);
        var request = new CertificateRequest("CN=scores.example", ecdsa, HashAlgorithmName.SHA256);
        using var certificate = request.CreateSelfSigned(DateTimeOffset.UtcNow.AddDays(-1), DateTimeOffset.UtcNow.AddDays(1));
        string listen = $$"""
            {"url":"https://0.0.0.0:0","hosts":["scores.example"],"keyFile":"{{_folder.Write("key", Key)}}","certificate":"{{_folder.Write("page.pem", certificate.ExportCertificatePem())}}","certificateKey":"{{_folder.Write("key.pem", ecdsa.ExportPkcs8PrivateKeyPem())}}"}
            """;
        using var stream = ServedStream.Listening(listen);
        string address = stream.Address.Replace("0.0.0.0", "127.0.0.1", StringComparison.Ordinal);
        using var handler = new HttpClientHandler { ServerCertificateCustomValidationCallback = (_, shown, _, _) => shown!.RawData.AsSpan().SequenceEqual(certificate.RawData), AllowAutoRedirect = false };
        using var client = new HttpClient(handler);

        async Task<HttpResponseMessage> GetAsync(string host, string? key)
        {
            using var message = new HttpRequestMessage(HttpMethod.Get, address + "/data/view");
            message.Headers.Host = host;
            if (key is not null) message.Headers.Authorization = new AuthenticationHeaderValue("Bearer", key);
            return await client.SendAsync(message, TestContext.Current.CancellationToken);
        }

        using var right = await GetAsync("scores.example", Key);
        using var without = await GetAsync("scores.example", null);
        using var foreign = await GetAsync("evil.example", Key);
        Assert.StartsWith("https://", stream.Address, StringComparison.Ordinal);
        Assert.Equal((HttpStatusCode.OK, HttpStatusCode.Unauthorized, HttpStatusCode.MisdirectedRequest), (right.StatusCode, without.StatusCode, foreign.StatusCode));
        Assert.Equal("max-age=31536000", Assert.Single(right.Headers.GetValues("Strict-Transport-Security")));
    }
}
