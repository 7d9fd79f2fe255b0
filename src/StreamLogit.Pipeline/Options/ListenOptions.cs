using System.Collections.Immutable;
using System.Net;

namespace StreamLogit.Pipeline.Options;

/// <summary>Where the worker serves its page, and who may see it. The access key itself stands in none of this.</summary>
/// <param name="Address">The address to listen on.</param>
/// <param name="Port">The port; 0 is any free one.</param>
public sealed record ListenOptions(IPAddress Address, int Port)
{
    /// <summary>Whether nothing but this machine can reach it.</summary>
    public bool IsLoopback => IPAddress.IsLoopback(Address);

    /// <summary>Names under which the page is asked for, besides the address itself and <c>localhost</c>. Default none.</summary>
    public ImmutableArray<string> Hosts { get; init; } = [];

    /// <summary>The environment variable that holds the access key, or null.</summary>
    public string? KeyVariable { get; init; }

    /// <summary>The file that holds the access key, or null.</summary>
    public string? KeyFile { get; init; }

    /// <summary>The file of the TLS certificate, PEM, or null where the page is served without TLS.</summary>
    public string? Certificate { get; init; }

    /// <summary>The file of the certificate's private key, PEM, or null where it stands in the certificate's file.</summary>
    public string? CertificateKey { get; init; }
}
