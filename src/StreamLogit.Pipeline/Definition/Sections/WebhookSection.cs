using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>webhook</c>: where changes of alarms are sent.</summary>
internal static class WebhookSection
{
    public static WebhookOptions? Read(ValueReader? value, FilePaths files)
    {
        if (value?.Object() is not { } section) return null;
        var url = Address(section.Required("url", "it says where changes of alarms are sent, as \"https://duty.example/alarms\""));
        var secretVariable = section.Optional("secretVariable");
        var secretFile = section.Optional("secretFile");
        section.End();
        if (secretVariable is null == secretFile is null)
        {
            section.Error(secretFile is null
                ? "expected the secret that signs what is sent: \"secretVariable\" (the name of an environment variable that holds it) or \"secretFile\" (a file that holds it)"
                : "has both \"secretVariable\" and \"secretFile\": keep one of the two");
        }
        string? variable = secretVariable?.Text(), file = files.Read(secretFile);
        return url is null ? null : new WebhookOptions(url) { SecretVariable = variable, SecretFile = file };
    }

    private static Uri? Address(ValueReader? value)
    {
        if (value?.Text() is not { } text) return null;
        if (Uri.TryCreate(text, UriKind.Absolute, out var url) && url.Scheme is "http" or "https" && url.UserInfo.Length == 0 && url.Fragment.Length == 0) return url;
        value.Error($"expected an address that begins with http:// or https:// and holds no password, found {value.Value.Describe()}");
        return null;
    }
}
