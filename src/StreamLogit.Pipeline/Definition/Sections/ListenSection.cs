using System.Collections.Immutable;
using System.Net;
using System.Text.Json;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>listen</c>: where the worker serves its page.</summary>
internal static class ListenSection
{
    private const int MostHosts = 100;
    private const string Form = "an address as \"http://127.0.0.1:7070\" or \"https://0.0.0.0:7443\": localhost or an IP address, and nothing behind the port";

    public static ListenOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value is null) return null;
        if (value.Value.Kind == JsonValueKind.String) return Checked(Address(value, out bool isTls), value, isTls);
        if (value.Object() is not { } section) return null;
        var url = section.Required("url", "it says where the page is served, as \"http://127.0.0.1:7070\"");
        var hosts = section.Optional("hosts");
        var keyVariable = section.Optional("keyVariable");
        var keyFile = section.Optional("keyFile");
        var certificate = section.Optional("certificate");
        var certificateKey = section.Optional("certificateKey");
        section.End();
        if (keyVariable is not null && keyFile is not null) keyFile.Error("the access key stands in a variable already: keep one of the two");
        if (certificate is null) certificateKey?.Error("there is no certificate that it belongs to: add \"certificate\"");
        bool isSecure = false;
        var options = url is null ? null : Address(url, out isSecure);
        string? certificatePath = files.Read(certificate), certificateKeyPath = files.Read(certificateKey);
        options = (options ?? new ListenOptions(IPAddress.Loopback, 0)) with
        {
            Hosts = Names(hosts),
            KeyVariable = keyVariable?.Text(),
            KeyFile = files.Read(keyFile),
            Certificate = certificatePath,
            CertificateKey = certificateKeyPath,
        };
        return url is null ? null : Checked(options, url, isSecure);
    }

    private static ListenOptions? Address(ValueReader value, out bool isTls)
    {
        isTls = false;
        if (value.Text() is not { } text) return null;
        bool isUrl = Uri.TryCreate(text, UriKind.Absolute, out var url) && url.Scheme is "http" or "https";
        if (!isUrl || url!.PathAndQuery != "/" || url.UserInfo.Length > 0 || url.Fragment.Length > 0 || !HasPort(text))
        {
            value.Error($"expected {Form}, found {value.Value.Describe()}");
            return null;
        }
        isTls = url.Scheme == Uri.UriSchemeHttps;
        if (url.IdnHost == "localhost") return new ListenOptions(IPAddress.Loopback, url.Port);
        if (IPAddress.TryParse(url.IdnHost, out var address)) return new ListenOptions(address, url.Port);
        value.Error($"expected {Form}; names under which the page is asked for stand in \"hosts\"");
        return null;
    }

    // A port that is left away would be 80 or 443, which hardly anybody means.
    private static bool HasPort(string url)
    {
        int colon = url.TrimEnd('/').LastIndexOf(':');
        return colon > 0 && colon + 1 < url.TrimEnd('/').Length && url.TrimEnd('/')[(colon + 1)..].All(char.IsAsciiDigit);
    }

    private static ListenOptions? Checked(ListenOptions? options, ValueReader url, bool isTls)
    {
        if (options is null) return null;
        if (isTls && options.Certificate is null) url.Error("https needs a certificate: write an object of \"url\", \"certificate\" and what else is needed");
        if (!isTls && options.Certificate is not null) url.Error("a certificate is there, so the address must begin with https");
        if (!options.IsLoopback && options.KeyFile is null && options.KeyVariable is null)
        {
            url.Error(
                "others than this machine can reach this address, so it needs an access key: write an object of \"url\" and \"keyFile\" (a file that holds the key) "
                + "or \"keyVariable\" (the name of an environment variable that holds it)");
        }
        return options;
    }

    private static ImmutableArray<string> Names(ValueReader? value)
    {
        if (value?.List("host names", MostHosts) is not { } items) return [];
        var names = ImmutableArray.CreateBuilder<string>();
        foreach (var item in items)
        {
            if (item.Text() is not { } name) continue;
            if (Uri.CheckHostName(name) == UriHostNameType.Unknown) item.Error($"expected a host name without a port, as \"scores.example\", found {item.Value.Describe()}");
            else names.Add(name);
        }
        return names.DrainToImmutable();
    }
}
