using System.Net;
using System.Net.Sockets;
using StreamLogit.Worker.Tests.Running;

namespace StreamLogit.Worker.Tests.Web;

/// <summary>Where a worker refuses to serve its page, it does not score either.</summary>
public sealed class ListenRefusalTests : IDisposable
{
    private readonly WorkerFolder _folder = new WorkerFolder("ferry-tickets").Demo();

    public void Dispose() => _folder.Dispose();

    [Theory]
    [InlineData("http://0.0.0.0:0", "so it needs an access key")]
    [InlineData("{\"url\":\"http://0.0.0.0:0\",\"keyVariable\":\"NO_SUCH_KEY\"}", "The environment variable NO_SUCH_KEY, which listen.keyVariable names, is not set")]
    [InlineData("{\"url\":\"http://0.0.0.0:0\",\"keyVariable\":\"SHORT_KEY\"}", "it is to have at least 16 characters")]
    [InlineData("{\"url\":\"http://0.0.0.0:0\",\"keyFile\":\"/no/such/file\"}", "cannot be read from the file that listen.keyFile names")]
    [InlineData("{\"url\":\"https://127.0.0.1:0\",\"certificate\":\"/no/such/file\"}", "The certificate of the page, /no/such/file, cannot be used")]
    public void Run_WithoutWhatTheAddressNeeds_IsRefusedBeforeAnythingIsDone(string listen, string message)
    {
        var result = StreamLogitProcess.RunWith([("SHORT_KEY", "too-short")], _folder.RunArguments(1000, "--until-end", "--set", $"listen={listen}"));

        Assert.Equal(2, result.ExitCode);
        Assert.Contains(message, result.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("too-short", result.Errors, StringComparison.Ordinal);
        Assert.False(Directory.Exists(_folder.State));
    }

    [Fact]
    public void Run_OnAPortThatIsTaken_FailsWithoutScoring()
    {
        using var taken = new TcpListener(IPAddress.Loopback, 0);
        taken.Start();

        var result = StreamLogitProcess.Run(_folder.RunArguments(1000, "--until-end", "--set", $"listen=http://127.0.0.1:{((IPEndPoint)taken.LocalEndpoint).Port}"));

        Assert.Equal(1, result.ExitCode);
        Assert.Contains("address already in use", result.Errors, StringComparison.Ordinal);
        Assert.Equal(0, new FileInfo(_folder.Scores).Length);
    }

    [Fact]
    public void Run_ToTheEndOfItsSource_EndsWithItsPage()
    {
        var result = StreamLogitProcess.RunWith(
            [("PAGE_KEY", "a-key-that-nobody-guesses")],
            _folder.RunArguments(1000, "--until-end", "--set", "listen={\"url\":\"http://0.0.0.0:0\",\"keyVariable\":\"PAGE_KEY\"}"));

        Assert.Equal(0, result.ExitCode);
        Assert.Contains("The health page is at http://", result.Errors, StringComparison.Ordinal);
        Assert.DoesNotContain("nobody-guesses", result.Errors + result.Output, StringComparison.Ordinal);
        var kept = Directory.GetFiles(_folder.State);
        Assert.NotEmpty(kept);
        Assert.All(kept, file => Assert.True(File.ReadAllBytes(file).AsSpan().IndexOf("nobody-guesses"u8) < 0, file));
    }
}
