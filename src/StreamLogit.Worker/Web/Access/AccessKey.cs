using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Worker.Web.Access;

/// <summary>
/// The access key of the page. Of the key itself only a hash is kept. Whoever gave it once in the form gets a session, which is a time and its signature by a secret that
/// ends with the process.
/// </summary>
internal sealed class AccessKey
{
    /// <summary>How long a session lasts.</summary>
    public static readonly TimeSpan SessionLength = TimeSpan.FromHours(12);

    private const int LongestSession = 100;

    private readonly byte[] _hash;
    private readonly byte[] _sessionSecret = RandomNumberGenerator.GetBytes(32);

    private AccessKey(string key) => _hash = Hash(key);

    /// <summary>Reads the key that the options name; null where they name none.</summary>
    /// <exception cref="WrongInputException">The key is not there, or too short to protect anything.</exception>
    public static AccessKey? Read(ListenOptions options) =>
        SecretText.Read("access key of the page", options.KeyVariable, "listen.keyVariable", options.KeyFile, "listen.keyFile") is { } key ? new AccessKey(key) : null;

    /// <summary>Whether this is the key. Takes as long whatever it is.</summary>
    public bool Matches(string? offered) => offered is not null && CryptographicOperations.FixedTimeEquals(Hash(offered), _hash);

    /// <summary>A new session.</summary>
    public string CreateSession(DateTimeOffset now)
    {
        string end = (now + SessionLength).ToUnixTimeSeconds().ToString(CultureInfo.InvariantCulture);
        return $"{end}.{Sign(end)}";
    }

    /// <summary>Whether this is a session of this process that has not ended.</summary>
    public bool IsSession(string? session, DateTimeOffset now)
    {
        if (session is null || session.Length > LongestSession || session.Split('.') is not [var end, var signature]) return false;
        bool isRight = CryptographicOperations.FixedTimeEquals(Encoding.UTF8.GetBytes(signature), Encoding.UTF8.GetBytes(Sign(end)));
        return isRight && long.TryParse(end, NumberStyles.None, CultureInfo.InvariantCulture, out long seconds) && now.ToUnixTimeSeconds() < seconds;
    }

    private string Sign(string text) => Convert.ToHexStringLower(HMACSHA256.HashData(_sessionSecret, Encoding.UTF8.GetBytes(text)));

    private static byte[] Hash(string key) => SHA256.HashData(Encoding.UTF8.GetBytes(key));
}
