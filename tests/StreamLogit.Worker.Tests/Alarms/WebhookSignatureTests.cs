using System.Text;
using StreamLogit.Worker.Alarms;

namespace StreamLogit.Worker.Tests.Alarms;

public sealed class WebhookSignatureTests
{
    [Fact]
    public void Of_TheExampleOfTheDocs_IsThatOfOpenssl()
    {
        // printf '1767225600.{"alarm":"a"}' | openssl dgst -sha256 -hmac 'a-shared-secret-of-the-docs'
        const string Expected = "v1=049cd2623165e7d7bc72d59c0613858cd8f0b881c41c21784463a6649d3b5252";

        Assert.Equal(Expected, WebhookSignature.Of("a-shared-secret-of-the-docs", "1767225600", Encoding.UTF8.GetBytes("""{"alarm":"a"}""")));
        Assert.Contains(Expected, RepositoryFiles.Read("docs/alarms.md"), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("another-shared-secret", "1767225600", "{}")]
    [InlineData("a-shared-secret-of-the-docs", "1767225601", "{}")]
    [InlineData("a-shared-secret-of-the-docs", "1767225600", "{ }")]
    public void Of_AnythingElse_IsAnother(string secret, string timestamp, string body) =>
        Assert.NotEqual(
            WebhookSignature.Of("a-shared-secret-of-the-docs", "1767225600", "{}"u8),
            WebhookSignature.Of(secret, timestamp, Encoding.UTF8.GetBytes(body)));
}
