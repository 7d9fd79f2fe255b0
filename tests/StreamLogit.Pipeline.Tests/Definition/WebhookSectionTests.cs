namespace StreamLogit.Pipeline.Tests.Definition;

public sealed class WebhookSectionTests
{
    [Theory]
    [InlineData("\"secretVariable\": \"DUTY\"", "DUTY", null)]
    [InlineData("\"secretFile\": \"duty.secret\"", null, "duty.secret")]
    public void Webhook_AddressAndSecret_AreRead(string secret, string? variable, string? file)
    {
        var options = Definitions.Read(Definitions.With($"\"webhook\": {{ \"url\": \"https://duty.example:8443/alarms?team=7\", {secret} }}")).Webhook!;

        Assert.Equal("https://duty.example:8443/alarms?team=7", options.Url.AbsoluteUri);
        Assert.Equal((variable, file), (options.SecretVariable, Path.GetFileName(options.SecretFile)));
        Assert.True(file is null || Path.IsPathRooted(options.SecretFile));
    }

    [Theory]
    [InlineData("{ \"url\": \"http://127.0.0.1:1\" }",
        "2:12: webhook: expected the secret that signs what is sent: \"secretVariable\" (the name of an environment variable that holds it) or \"secretFile\" (a file that holds it)")]
    [InlineData("{ \"url\": \"http://127.0.0.1:1\", \"secretFile\": \"s\", \"secretVariable\": \"S\" }", "2:12: webhook: has both \"secretVariable\" and \"secretFile\": keep one of the two")]
    [InlineData("{ \"secretFile\": \"s\" }", "2:12: webhook: the key \"url\" is missing: it says where changes of alarms are sent, as \"https://duty.example/alarms\"")]
    [InlineData("{ \"url\": \"duty.example\", \"secretFile\": \"s\" }", "2:21: webhook.url: expected an address that begins with http:// or https:// and holds no password, found the string \"duty.example\"")]
    [InlineData("{ \"url\": \"ftp://duty.example\", \"secretFile\": \"s\" }", "2:21: webhook.url: expected an address that begins with http:// or https:// and holds no password, found the string \"ftp://duty.example\"")]
    public void Webhook_Wrong_IsRefused(string webhook, string expected) =>
        Assert.Equal($"quay.json:{expected}", Assert.Single(Definitions.Errors(Definitions.With($"\"webhook\": {webhook}"))).ToString());

    [Fact]
    public void Webhook_SecretInTheDefinition_IsRefused()
    {
        var errors = Definitions.Errors(Definitions.With("\"webhook\": { \"url\": \"http://127.0.0.1:1\", \"secret\": \"in plain sight, alas\" }"));

        Assert.Contains(errors, error => error.Path == "webhook.secret");
    }
}
