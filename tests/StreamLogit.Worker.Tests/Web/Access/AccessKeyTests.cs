using System.Net;
using StreamLogit.Pipeline.Options;
using StreamLogit.Worker.Web.Access;

namespace StreamLogit.Worker.Tests.Web.Access;

public sealed class AccessKeyTests : IDisposable
{
    private const string Text = "a-key-that-nobody-guesses";
    private static readonly DateTimeOffset Now = new(2026, 3, 1, 12, 0, 0, TimeSpan.Zero);
    private readonly TemporaryFolder _folder = new();

    public void Dispose() => _folder.Dispose();

    [Fact]
    public void Read_FileWithALineEnd_TakesTheKeyWithoutIt()
    {
        var key = Read(Text + "\r\n");

        Assert.True(key.Matches(Text));
        Assert.False(key.Matches(Text + "\n"));
        Assert.False(key.Matches(Text[1..]));
        Assert.False(key.Matches(""));
        Assert.False(key.Matches(null));
    }

    [Theory]
    [InlineData("")]
    [InlineData("fifteen-letters")]
    [InlineData("sixteen letters and blanks")]
    [InlineData("a-key-on-the-first\nand-the-second-line")]
    public void Read_KeyThatProtectsNothing_IsRefusedWithoutSayingIt(string text)
    {
        var error = Assert.Throws<WrongInputException>(() => Read(text));

        Assert.Contains("at least 16 characters", error.Message, StringComparison.Ordinal);
        if (text.Length > 0) Assert.DoesNotContain(text, error.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Session_OfThisKey_LastsTwelveHours()
    {
        var key = Read(Text);
        string session = key.CreateSession(Now);

        Assert.True(key.IsSession(session, Now.AddHours(11.9)));
        Assert.False(key.IsSession(session, Now.AddHours(12)));
    }

    [Fact]
    public void Session_ChangedOrOfAnotherProcess_IsNone()
    {
        var key = Read(Text);
        string session = key.CreateSession(Now);
        string[] parts = session.Split('.');

        Assert.False(key.IsSession($"{long.Parse(parts[0], null) + 1}.{parts[1]}", Now));
        Assert.False(key.IsSession($"{parts[0]}.{parts[1][..^1]}", Now));
        Assert.False(key.IsSession($"{parts[0]}.", Now));
        Assert.False(key.IsSession($"{parts[0]}.{new string('A', 43)}", Now));
        Assert.False(key.IsSession("", Now));
        Assert.False(key.IsSession(null, Now));
        Assert.False(key.IsSession(new string('.', 10_000), Now));
        Assert.False(Read(Text).IsSession(session, Now));
    }

    private AccessKey Read(string text) => AccessKey.Read(new ListenOptions(IPAddress.Any, 0) { KeyFile = _folder.Write("key", text) })!;
}
