using System.Net;

namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class ListenSectionTests
{
    private const string KeyMissing =
        "others than this machine can reach this address, so it needs an access key: write an object of \"url\" and \"keyFile\" (a file that holds the key) "
        + "or \"keyVariable\" (the name of an environment variable that holds it)";

    private const string Form = "an address as \"http://127.0.0.1:7070\" or \"https://0.0.0.0:7443\": localhost or an IP address, and nothing behind the port";

    [Theory]
    [InlineData("\"http://127.0.0.1:7070\"", "127.0.0.1", 7070)]
    [InlineData("\"http://localhost:0/\"", "127.0.0.1", 0)]
    [InlineData("\"http://[::1]:80\"", "::1", 80)]
    [InlineData("{ \"url\": \"http://127.8.0.1:7070\" }", "127.8.0.1", 7070)]
    public void Listen_OnLoopback_NeedsNoKey(string listen, string address, int port)
    {
        var options = Definitions.Read(Definitions.With($"\"listen\": {listen}")).Listen!;

        Assert.Equal((IPAddress.Parse(address), port, true), (options.Address, options.Port, options.IsLoopback));
        Assert.Null(options.KeyFile ?? options.KeyVariable ?? options.Certificate);
    }

    [Fact]
    public void Listen_WithEverything_IsRead()
    {
        var options = Definitions.Read(Definitions.With(
            "\"listen\": { \"url\": \"https://[::]:7443\", \"hosts\": [\"scores.example\", \"10.0.0.9\"], \"keyFile\": \"k\", \"certificate\": \"c.pem\", \"certificateKey\": \"d.pem\" }")).Listen!;

        Assert.Equal((IPAddress.IPv6Any, 7443, false), (options.Address, options.Port, options.IsLoopback));
        Assert.Equal(["scores.example", "10.0.0.9"], options.Hosts);
        Assert.Equal(["k", "c.pem", "d.pem"], new[] { options.KeyFile, options.Certificate, options.CertificateKey }.Select(Path.GetFileName));
    }

    [Theory]
    [InlineData("\"listen\": \"http://0.0.0.0:7070\"", "2:11: listen: " + KeyMissing)]
    [InlineData("\"listen\": { \"url\": \"http://192.0.2.7:7070\" }", "2:20: listen.url: " + KeyMissing)]
    [InlineData("\"listen\": { \"url\": \"http://[::]:7070\", \"hosts\": [\"a\"] }", "2:20: listen.url: " + KeyMissing)]
    [InlineData("\"listen\": \"http://127.0.0.1\"", "2:11: listen: expected " + Form + ", found the string \"http://127.0.0.1\"")]
    [InlineData("\"listen\": \"ftp://127.0.0.1:1\"", "2:11: listen: expected " + Form + ", found the string \"ftp://127.0.0.1:1\"")]
    [InlineData("\"listen\": \"http://u:p@127.0.0.1:1\"", "2:11: listen: expected " + Form + ", found the string \"http://u:p@127.0.0.1:1\"")]
    [InlineData("\"listen\": \"http://127.0.0.1:1/?a\"", "2:11: listen: expected " + Form + ", found the string \"http://127.0.0.1:1/?a\"")]
    [InlineData("\"listen\": \"http://scores.example:7070\"", "2:11: listen: expected " + Form + "; names under which the page is asked for stand in \"hosts\"")]
    [InlineData("\"listen\": \"https://127.0.0.1:7070\"", "2:11: listen: https needs a certificate: write an object of \"url\", \"certificate\" and what else is needed")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:7070\", \"certificate\": \"c\" }", "2:20: listen.url: a certificate is there, so the address must begin with https")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:1\", \"keyFile\": \"k\", \"keyVariable\": \"K\" }", "2:53: listen.keyFile: the access key stands in a variable already: keep one of the two")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:1\", \"certificateKey\": \"k\" }", "2:60: listen.certificateKey: there is no certificate that it belongs to: add \"certificate\"")]
    [InlineData("\"listen\": { \"url\": \"http://127.0.0.1:1\", \"hosts\": [\"a:7070\"] }", "2:52: listen.hosts[0]: expected a host name without a port, as \"scores.example\", found the string \"a:7070\"")]
    [InlineData("\"listen\": 7070", "2:11: listen: expected an object, found the number 7070")]
    [InlineData("\"listen\": {}", "2:11: listen: the key \"url\" is missing: it says where the page is served, as \"http://127.0.0.1:7070\"")]
    public void Listen_Wrong_IsRefused(string keys, string expected) =>
        Assert.Equal($"quay.json:{expected}", Assert.Single(Definitions.Errors(Definitions.With(keys))).ToString());
}
