using StreamLogit.Pipeline.Options;

namespace StreamLogit.Worker.Alarms;

/// <summary>Where changes of alarms are sent, with the secret at hand.</summary>
internal sealed class WebhookTarget
{
    private WebhookTarget(Uri url, string secret) => (Url, Secret) = (url, secret);

    /// <summary>The address.</summary>
    public Uri Url { get; }

    /// <summary>The shared secret. It reaches no log, page or state.</summary>
    public string Secret { get; }

    /// <summary>Reads the secret.</summary>
    /// <exception cref="WrongInputException">It cannot be used.</exception>
    public static WebhookTarget Read(WebhookOptions options) => new(
        options.Url,
        SecretText.Read("shared secret of the webhook", options.SecretVariable, "webhook.secretVariable", options.SecretFile, "webhook.secretFile")
            ?? throw new WrongInputException("The webhook has no shared secret."));
}
