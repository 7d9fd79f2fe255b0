using System.Security.Cryptography;
using System.Security.Cryptography.X509Certificates;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Worker.Web.Access;

/// <summary>Where the page is served and who may see it, with what that takes at hand.</summary>
/// <param name="Listen">Where it is served.</param>
/// <param name="Key">The key that viewers must know, or null where nobody but this machine can reach it.</param>
/// <param name="Certificate">The TLS certificate, or null without TLS.</param>
internal sealed record PageAccess(ListenOptions Listen, AccessKey? Key, X509Certificate2? Certificate)
{
    /// <summary>Reads key and certificate.</summary>
    /// <exception cref="WrongInputException">One of them cannot be used.</exception>
    public static PageAccess Read(ListenOptions listen) => new(listen, AccessKey.Read(listen), ReadCertificate(listen));

    private static X509Certificate2? ReadCertificate(ListenOptions listen)
    {
        if (listen.Certificate is null) return null;
        try
        {
            return X509Certificate2.CreateFromPemFile(listen.Certificate, listen.CertificateKey);
        }
        catch (Exception exception) when (exception is CryptographicException or IOException or UnauthorizedAccessException)
        {
            throw new WrongInputException($"The certificate of the page, {listen.Certificate}, cannot be used: {exception.Message}");
        }
    }
}
