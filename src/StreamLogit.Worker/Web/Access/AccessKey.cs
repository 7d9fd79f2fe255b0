using System.Globalization;
using System.Security.Cryptography;
using System.Text;
using Microsoft.AspNetCore.WebUtilities;
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

    private const int LeastCharacters = 16;

    private readonly byte[] _hash;
    private readonly byte[] _sessionSecret = RandomNumberGenerator.GetBytes(32);

    private AccessKey(string key) => _hash = Hash(key);

    /// <summary>Reads the key that the options name; null where they name none.</summary>
    /// <exception cref="WrongInputException">The key is not there, or too short to protect anything.</exception>
    public static AccessKey? Read(ListenOptions options)
    {
        if (options.KeyVariable is { } variable)
        {
            string key = Environment.GetEnvironmentVariable(variable)
                ?? throw new WrongInputException($"The environment variable {variable}, which listen.keyVariable names, is not set: it is to hold the access key of the page.");
            return Checked(key, $"the environment variable {variable}");
        }
        if (options.KeyFile is not { } file) return null;
        try
        {
            return Checked(File.ReadAllText(file), file);
        }
        catch (Exception exception) when (exception is IOException or UnauthorizedAccessException)
        {
            throw new WrongInputException($"The access key of the page cannot be read from the file that listen.keyFile names: {exception.Message}");
        }
    }

    /// <summary>Whether this is the key. Takes as long whatever it is.</summary>
    public bool Matches(string? offered) => offered is not null && CryptographicOperations.FixedTimeEquals(Hash(offered), _hash);

    /// <summary>A new session.</summary>
    public string CreateSession(DateTimeOffset now)
    {
        string end = (now + SessionLength).ToUnixTimeSeconds().ToString(CultureInfo.InvariantCulture);
        return $"{end}.{WebEncoders.Base64UrlEncode(Sign(end))}";
    }

    /// <summary>Whether this is a session of this process that has not ended.</summary>
    public bool IsSession(string? session, DateTimeOffset now)
    {
        if (session?.Split('.') is not [var end, var signature] || signature.Length > 64) return false;
        Span<byte> offered = stackalloc byte[32];
        bool isRight = Convert(signature, offered) && CryptographicOperations.FixedTimeEquals(offered, Sign(end));
        return isRight && long.TryParse(end, NumberStyles.None, CultureInfo.InvariantCulture, out long seconds) && now.ToUnixTimeSeconds() < seconds;
    }

    private static bool Convert(string base64Url, Span<byte> bytes) =>
        System.Buffers.Text.Base64Url.TryDecodeFromChars(base64Url, bytes, out int written) && written == bytes.Length;

    private static AccessKey Checked(string text, string place)
    {
        string key = text.TrimEnd('\r', '\n');
        if (key.Length < LeastCharacters || key.Any(char.IsWhiteSpace) || key.Any(char.IsControl))
            throw new WrongInputException($"The access key of the page in {place} cannot be used: it is to have at least {LeastCharacters} characters, on one line and without blanks.");
        return new AccessKey(key);
    }

    private byte[] Sign(string text) => HMACSHA256.HashData(_sessionSecret, Encoding.UTF8.GetBytes(text));

    private static byte[] Hash(string key) => SHA256.HashData(Encoding.UTF8.GetBytes(key));
}
