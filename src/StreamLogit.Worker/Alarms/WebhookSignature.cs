using System.Globalization;
using System.Security.Cryptography;
using System.Text;

namespace StreamLogit.Worker.Alarms;

/// <summary>
/// Signs what is sent, so that the receiver knows who sent it and when: HMAC-SHA256 (RFC 2104) with the shared secret over the time of sending in seconds since 1970, a dot,
/// and the body.
/// </summary>
internal static class WebhookSignature
{
    /// <summary>The header of the time of sending.</summary>
    public const string TimestampHeader = "StreamLogit-Timestamp";

    /// <summary>The header of the signature: <c>v1=</c> and 64 hexadecimal digits.</summary>
    public const string Header = "StreamLogit-Signature";

    /// <summary>The header of the change's id.</summary>
    public const string IdHeader = "StreamLogit-Id";

    /// <summary>The time of sending as it is signed and sent.</summary>
    public static string Timestamp(DateTimeOffset now) => now.ToUnixTimeSeconds().ToString(CultureInfo.InvariantCulture);

    /// <summary>The signature of a body sent at a time.</summary>
    public static string Of(string secret, string timestamp, ReadOnlySpan<byte> body)
    {
        using var hmac = IncrementalHash.CreateHMAC(HashAlgorithmName.SHA256, Encoding.UTF8.GetBytes(secret));
        hmac.AppendData(Encoding.UTF8.GetBytes(timestamp));
        hmac.AppendData("."u8);
        hmac.AppendData(body);
        return "v1=" + Convert.ToHexStringLower(hmac.GetHashAndReset());
    }
}
