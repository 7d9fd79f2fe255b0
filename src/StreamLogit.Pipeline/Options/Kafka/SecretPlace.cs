namespace StreamLogit.Pipeline.Options.Kafka;

/// <summary>Where a secret is found when the program starts. The secret itself is in no definition.</summary>
/// <param name="Name">The environment variable, or the file.</param>
/// <param name="IsFile">Whether it is a file, of which a line end behind the secret is no part.</param>
public sealed record SecretPlace(string Name, bool IsFile);
