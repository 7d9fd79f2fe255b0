namespace StreamLogit.Pipeline.Options;

/// <summary>Where changes of alarms are sent. The secret itself stands in none of this.</summary>
/// <param name="Url">The address that they are posted to, http or https.</param>
public sealed record WebhookOptions(Uri Url)
{
    /// <summary>The environment variable that holds the shared secret, or null.</summary>
    public string? SecretVariable { get; init; }

    /// <summary>The file that holds the shared secret, or null. There is this or <see cref="SecretVariable"/>.</summary>
    public string? SecretFile { get; init; }
}
