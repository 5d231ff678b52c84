using System.Net;
using System.Net.Sockets;

namespace Qc.Service.Features.Callbacks;

/// <summary>
/// Where a callback may go. A LIMS stands in the plant's own network, so private addresses are allowed; addresses by which a
/// service reaches its own host or the instance data of a cloud are not, whoever's name leads there.
/// </summary>
internal static class CallbackAddress
{
    /// <summary>Instance data services of clouds outside the link-local range (from memory).</summary>
    private static readonly IPAddress[] InstanceData =
        [IPAddress.Parse("100.100.100.200"), IPAddress.Parse("192.0.0.192"), IPAddress.Parse("fd00:ec2::254")];

    /// <summary>Whether a callback may be sent to an address.</summary>
    /// <param name="address">The address that a name leads to.</param>
    /// <param name="toThisHost">Whether the loopback is allowed, as on a laptop.</param>
    public static bool IsAllowed(IPAddress address, bool toThisHost)
    {
        IPAddress plain = address.IsIPv4MappedToIPv6 ? address.MapToIPv4() : address;
        if (IPAddress.IsLoopback(plain))
        {
            return toThisHost;
        }

        byte[] bytes = plain.GetAddressBytes();
        return plain.AddressFamily == AddressFamily.InterNetwork
            ? bytes[0] is not 0 && !(bytes[0] == 169 && bytes[1] == 254) && bytes[0] < 224 && !InstanceData.Contains(plain)
            : !plain.IsIPv6LinkLocal && !plain.IsIPv6Multicast && !plain.Equals(IPAddress.IPv6Any) && !InstanceData.Contains(plain);
    }
}
